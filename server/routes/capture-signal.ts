/** What is in a capture: its samples for a picture, and what the signal path makes of them. */
import { getCapture } from '@/db';
import type { CaptureRecord, CaptureStore, TurnmarkDb } from '@/db';
import type { AnalysisWish, CaptureAnalyses } from '@/server/captures/analyses';
import { filteredSamples } from '@/server/captures/filtered-samples';
import { rawSamples } from '@/server/captures/samples';
import { zeroPhaseSamples } from '@/server/captures/zero-phase-samples';
import { analysis, analysisInput, samples, samplesQuery } from '@/server/contract';
import { ApiProblem, invalidField } from '@/server/http/problems';
import type { Answer, Route } from '@/server/http/route';
import { route } from '@/server/http/route';
import { setupOf, signalSettingsOf } from '@/server/rigs';
import type { SetupIssue } from '@/signal/pipeline-types';
import { validateSetup } from '@/signal/validate-setup';
import type { Response } from 'express';
import { captureParams, found } from './shared';

export type CaptureSignalDeps = { db: TurnmarkDb; store: CaptureStore; analyses: CaptureAnalyses };

const tag = 'Captures';

/** The capture stands as it was kept; that it cannot be run so is a fact about it, not about the request. */
function keptProblem(issue: SetupIssue): ApiProblem {
  return new ApiProblem('conflict', {
    detail: `The settings that it was kept with do not fit it. ${issue.detail}`,
  });
}

/** Pointers of the signal path lead into the settings or the rig; here they lead into the request. */
function wishProblem({ pointer, detail }: SetupIssue): ApiProblem {
  const inRequest = /^\/(filter|band|holdoffS|speed)\b/.test(pointer) ? `/settings${pointer}` : pointer;
  return invalidField(inRequest, detail);
}

export function captureSignalRoutes({ db, store, analyses }: CaptureSignalDeps): Route[] {
  async function answerAnalysis(
    capture: CaptureRecord,
    wish: AnalysisWish,
    res: Response,
    problemOf: (issue: SetupIssue) => ApiProblem,
  ): Promise<Answer> {
    if (analyses.busy) {
      throw new ApiProblem('unavailable', {
        detail: 'Many analyses are waiting. Try again a little later.',
        headers: { 'Retry-After': '2' },
      });
    }
    const result = await analyses.analyse(capture, wish);
    if (!result.ok) throw problemOf(result.issue);
    res.status(200).type('application/json').send(result.value.json);
    return undefined;
  }

  return [
    route({
      method: 'get',
      path: '/captures/:captureId/samples',
      access: 'reviewer',
      tag,
      summary: 'Samples of one channel, for drawing',
      description:
        'At most `points` columns of minimum and maximum, or the samples themselves where there are fewer.',
      params: captureParams,
      query: samplesQuery,
      answers: [{ status: 200, description: 'Volts, null inside gaps', schema: samples }],
      problems: ['not-found', 'conflict'],
      async handle({ params, query }) {
        const capture = found(await getCapture(db, params.captureId), 'capture');
        const { channel, fromS, toS = capture.durationS, points, signal } = query;
        if (!capture.channels.includes(channel)) {
          throw invalidField('/channel', `The capture has the channels ${capture.channels.join(', ')}.`);
        }
        if (!(toS > fromS)) throw invalidField('/toS', 'must be after fromS');
        const wish = { channel, fromS, toS, points };
        if (signal === 'raw')
          return { status: 200, body: found(await rawSamples(store, capture, wish), 'capture') };
        const settings = signalSettingsOf(capture.settings);
        const issue = validateSetup(setupOf(capture.rig), settings, capture.rateHz, capture.channels);
        if (issue !== null) throw keptProblem(issue);
        if (signal === 'filtered') return { status: 200, body: await filteredSamples(store, capture, wish) };
        const both = await zeroPhaseSamples(store, capture, wish);
        if (!both.ok) throw keptProblem(both.issue);
        return { status: 200, body: both.value };
      },
    }),
    route({
      method: 'get',
      path: '/captures/:captureId/analysis',
      access: 'reviewer',
      tag,
      summary: 'Edges, speed, direction, counts and findings, as it was kept',
      params: captureParams,
      answers: [{ status: 200, description: 'Times in seconds from the first sample', schema: analysis }],
      problems: ['not-found', 'conflict', 'unavailable'],
      async handle({ params, res }) {
        const capture = found(await getCapture(db, params.captureId), 'capture');
        return answerAnalysis(capture, analyses.keptWish(capture), res, keptProblem);
      },
    }),
    route({
      method: 'post',
      path: '/captures/:captureId/analysis',
      access: 'reviewer',
      tag,
      summary: 'The same under other settings, or another wheel',
      params: captureParams,
      body: analysisInput,
      answers: [{ status: 200, description: 'Times in seconds from the first sample', schema: analysis }],
      problems: ['not-found', 'unavailable'],
      async handle({ params, body: { settings, wheel, zeroPhase }, res }) {
        const capture = found(await getCapture(db, params.captureId), 'capture');
        const wish = { settings: signalSettingsOf(settings), wheel: wheel ?? capture.rig.wheel, zeroPhase };
        return answerAnalysis(capture, wish, res, wishProblem);
      },
    }),
  ];
}
