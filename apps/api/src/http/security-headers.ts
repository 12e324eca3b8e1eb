import helmet from 'helmet';
import { type RequestHandler } from 'express';

/**
 * Headers that tell the browser what the client may do. Over plain HTTP there is neither HSTS nor an upgrade of requests:
 * a desk on a laboratory's network has no certificate.
 */
export function securityHeaders(https: boolean): RequestHandler {
  return helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        'default-src': ["'self'"],
        // No inline scripts; the preflight computes in WebAssembly, which 'wasm-unsafe-eval' allows and eval not.
        'script-src': ["'self'", "'wasm-unsafe-eval'"],
        'script-src-attr': ["'none'"],
        // Angular puts each component's styles into a <style> element, Plotly and the CDK set style attributes.
        'style-src': ["'self'", "'unsafe-inline'"],
        // Plates are saved as pictures through data: and blob: addresses.
        'img-src': ["'self'", 'data:', 'blob:'],
        'font-src': ["'self'"],
        'connect-src': ["'self'"],
        'worker-src': ["'self'"],
        'object-src': ["'none'"],
        'base-uri': ["'self'"],
        'form-action': ["'self'"],
        'frame-ancestors': ["'none'"],
        ...(https && { 'upgrade-insecure-requests': [] }),
      },
    },
    strictTransportSecurity: https ? { maxAge: 180 * 24 * 3600 } : false,
    // Browsers ignore these two on plain HTTP, with a complaint in the console.
    crossOriginOpenerPolicy: https,
    originAgentCluster: https,
    xFrameOptions: { action: 'deny' },
    referrerPolicy: { policy: 'no-referrer' },
  });
}
