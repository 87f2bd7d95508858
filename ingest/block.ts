/**
 * The one contract between a wire format and the hub: a run of equally spaced samples of one or more channels.
 * An integer sample array holds ADC codes, a float one volts (see `SampleArray`).
 */
import type { SampleArray } from '@/signal/model';

export type BlockChannel = { name: string; samples: SampleArray };

export type Block = {
  /** Names this run of the board, 1 to 64 characters. */
  stream: string;
  /** 0 to 2^32 - 1, +1 for each block of the stream. */
  seq: number;
  /** Samples per second of each channel; undefined where the sender left it out (later blocks of a stream). */
  rateHz: number | undefined;
  /** The board's own clock at the first sample, s. */
  timeS: number | undefined;
  /** Samples of each channel. */
  length: number;
  channels: BlockChannel[];
};

export const blockLimits = {
  maxStreamChars: 64,
  maxSeq: 2 ** 32 - 1,
  minRateHz: 1,
  maxRateHz: 1_000_000,
  maxChannelNameChars: 16,
  maxSamplesPerChannel: 65_536,
  /**
   * What a sample in volts may have, either sign. No input of a board is rated for it, also behind a probe, so that what
   * lies beyond is no voltage: a code sent as a float, or bytes in the wrong order. One such sample would ring in a
   * high pass for longer than anything true in the stream.
   */
  maxVolts: 1_000_000,
  maxChannels: 8,
  /** CBOR or JSON message. */
  maxMessageBytes: 1024 * 1024,
  /** Items of a batch that do not even name a block; with more, the message is not taken for a batch. */
  maxNameless: 256,
  /** CSV or SenML body. */
  maxBodyBytes: 64 * 1024 * 1024,
} as const;

/** Why a message, or one block of it, cannot be taken. `slug` is the last part of the problem's `type`. */
export type IngestIssue = {
  slug: 'unreadable' | 'invalid' | 'stream-changed' | 'too-late' | 'too-large' | 'content-type';
  /** HTTP status that says the same. */
  status: 400 | 413 | 415 | 422;
  /** One sentence for people: what is wrong, where. */
  detail: string;
  /** JSON pointer to the field, where one is at fault. */
  pointer: string | undefined;
  /** Byte, line or row, where known. */
  at: string | undefined;
};
