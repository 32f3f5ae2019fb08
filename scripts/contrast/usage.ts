export const usage = `Runs a plan over recordings without a browser: the same engine, the same digest.

  npm run -s contrast -- --plan plan.json --recording a.edf [--recording b.edf ...] --out DIR

  --plan FILE        the plan as JSON: "Download" on the Define page, or --example
  --recording FILE   an EDF or EDF+ recording of the plan; once for each. Recordings are recognised
                     by the SHA-256 that the plan states (sha256sum FILE gives it), also where the
                     plan's copy had its identifying header fields blanked at upload. Sidecars that
                     lie beside it by their BIDS name are read: NAME_events.tsv, NAME_channels.tsv,
                     NAME_electrodes.tsv
  --out DIR          where the result goes; made whole or not at all
  --overwrite        replace an earlier result in DIR
  --workers N        threads, 1 to 64; as many as there are cores by default. The result does not
                     depend on it
  --seed S           another seed than the plan's; result.json says so
  --quiet            no progress and no closing line
  --example          print a complete plan and end
  --help             print this and end

Files in DIR
  result.json        the plan as run, hashes, engine version, seed, digest, counts, epochs left out,
                     timings, the axes, and shape, axes and meaning of each map
  edges.tsv          the claimed edges under the plan's first correction; edges-ID.tsv under each
                     further one; clusters.tsv all clusters. A .json beside each describes it
  *.npy              maps by pair, frequency and time: observed-a, observed-b, difference, z, p,
                     adjusted-p-ID, null-mean, null-sd, upper and lower counts, lag-a, lag-b; and by
                     permutation: max-statistic, cluster-mass

Exit codes
  0  done    1  the run failed    2  something given cannot be used    130  interrupted
With 1, 2 and 130 DIR is as it was; the reason stands in one line on stderr.

For research. Not a medical device, and no basis for a diagnosis.
`;
