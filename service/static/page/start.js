// Starts the list of operations; addresses are relative, so a path prefix needs no setting here.
window.addEventListener("load", function () {
  window.ui = SwaggerUIBundle({
    url: "openapi.json",
    dom_id: "#operations",
    deepLinking: true,
    displayRequestDuration: true,
    defaultModelsExpandDepth: 0,
    defaultModelExpandDepth: 3,
    docExpansion: "list",
    validatorUrl: null,
    presets: [SwaggerUIBundle.presets.apis],
    layout: "BaseLayout",
  });
});
