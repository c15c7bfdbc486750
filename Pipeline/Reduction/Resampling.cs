using Pipeline.Statistics;

namespace Pipeline.Reduction;

/// <summary>Another run that could as well have been recorded, by the scatter between blocks of shots.</summary>
public static class Resampling
{
    /// <summary>Draws blocks anew within every condition and kind; each group of the result is one block.</summary>
    public static BinnedRun Draw(BinnedRun run, Random random) => run with { Groups = [.. run.Groups.Select(g => Draw(g, random))] };

    static ShotGroup Draw(ShotGroup group, Random random)
    {
        double[] weights = Bootstrap.Weights(group.BlockShots.Length, random);
        var sums = new double[group.BlockSums[0].Length];
        (double shots, double probe, double ablation) = (0, 0, 0);
        for (int b = 0; b < weights.Length; b++)
        {
            double w = weights[b];
            if (w == 0) continue;
            for (int i = 0; i < sums.Length; i++) sums[i] += w * group.BlockSums[b][i];
            shots += w * group.BlockShots[b];
            probe += w * group.BlockProbeMonitor[b];
            ablation += w * group.BlockAblationMonitor[b];
        }
        return group with { BlockSums = [sums], BlockShots = [shots], BlockProbeMonitor = [probe], BlockAblationMonitor = [ablation] };
    }
}
