export const cliHelp = `Streams a simulated rig to a Turnmark hub, or writes a recording of one.

  TURNMARK_RIG_KEY=... npm run simulate -- --rig "Line hauler"
  npm run simulate -- --rig "Spool guide" --csv guide.csv --from 60 --seconds 20

Rig
  --list               the rigs and the faults in their loops
  --rig NAME           which one (its setup on the hub must have the same channels)
  --seed N             another wheel and other noise of the same make (1)
  --fault NAME         adds a fault for the whole run; may be given more than once:
                       weak-tooth missing-tooth uneven-pitch burr run-out gap-wide gap-narrow
                       clipping hum noise spikes freeze offset-drift dead-channel inverted-line
                       weak-pull-up points-drift bounce phase supply-ripple; NAME:A for channel A only,
                       NAME@FROM-TO for that part of the rig's loop, in seconds

Streaming
  --url URL            the hub (http://127.0.0.1:4680)
  --key-file FILE      the rig key, - for standard input; else TURNMARK_RIG_KEY.
                       A key is never given on the command line.
  --transport ws|http  (ws)
  --format cbor|json   (cbor)
  --block MS           length of a block (40)
  --speed X            seconds of the rig in one second (1)
  --seconds S          ends after so long; runs until Ctrl-C without
  --quiet              only what ends the run

Recording
  --csv FILE           writes t and volts, and what really happened to FILE.truth.json
  --from S             begins so far into the rig's loop (0)
  --seconds S          (10)

What is not acked is kept and sent again after a reconnect; sending twice is safe.`;
