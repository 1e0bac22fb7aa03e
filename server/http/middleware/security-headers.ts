import helmet from 'helmet';

/**
 * A content security policy without inline script or style elements. Style attributes are allowed: charts
 * and positioned elements set them, and they cannot load or run anything.
 */
export const securityHeaders = (dev: boolean) =>
  helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'self'"],
        scriptSrc: dev ? ["'self'", "'unsafe-inline'"] : ["'self'"],
        styleSrc: dev ? ["'self'", "'unsafe-inline'"] : ["'self'"],
        styleSrcAttr: ["'unsafe-inline'"],
        imgSrc: ["'self'", 'data:'],
        fontSrc: ["'self'"],
        connectSrc: dev ? ["'self'", 'ws:'] : ["'self'"],
        objectSrc: ["'none'"],
        baseUri: ["'none'"],
        formAction: ["'self'"],
        frameAncestors: ["'none'"],
      },
    },
    strictTransportSecurity: false,
  });
