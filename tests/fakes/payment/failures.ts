/** The service's error answers. */

export class ApiFailure extends Error {
  constructor(
    readonly status: number,
    readonly body: {
      type: string;
      code?: string;
      message: string;
      param?: string;
      decline_code?: string;
      payment_intent?: unknown;
    },
  ) {
    super(body.message);
  }
}

export const missing = (param: string): ApiFailure =>
  new ApiFailure(400, {
    type: 'invalid_request_error',
    code: 'parameter_missing',
    message: `Missing required param: ${param}.`,
    param,
  });

export const invalid = (param: string, message: string): ApiFailure =>
  new ApiFailure(400, { type: 'invalid_request_error', code: 'parameter_invalid', message, param });

export const noSuch = (kind: string, id: string): ApiFailure =>
  new ApiFailure(404, {
    type: 'invalid_request_error',
    code: 'resource_missing',
    message: `No such ${kind}: '${id}'`,
    param: 'id',
  });
