using Pipeline.Apparatus;

namespace Pipeline.Comparison;

/// <summary>What each nuisance moves in a folded prediction.</summary>
/// <param name="setup">The apparatus.</param>
/// <param name="counts">[bins] of the prediction.</param>
/// <param name="fold">[bins] of the prediction in another apparatus.</param>
sealed class MovedPredictions(Setup setup, double[] counts, Func<Setup, double[]> fold)
{
    /// <summary>Of every nuisance that moves something, for one standard deviation.</summary>
    /// <param name="merged">Bins to groups of bins.</param>
    public IReadOnlyList<(string Name, double[] Vector)> All(Func<double[], double[]> merged)
    {
        IReadOnlyList<Nuisance> nuisances = Nuisances.Of(setup);
        var moved = new double[nuisances.Count][];
        Parallel.For(0, moved.Length, k => moved[k] = merged(Moved(nuisances[k])));
        return [.. nuisances.Select((n, k) => (n.Name, moved[k])).Where(m => m.Item2.Any(x => x != 0))];
    }

    double[] Moved(Nuisance nuisance)
    {
        Setup above = nuisance.Shift(setup, 1), below = nuisance.Shift(setup, -1);
        if (!Predictions.PredictionFold.TellsApart(setup, above)) return new double[counts.Length];
        if (nuisance.ScalesOnly) return [.. counts.Select(c => c * (above.CountsPerPhoton - below.CountsPerPhoton) / (2 * setup.CountsPerPhoton))];
        double[] up = fold(above), down = fold(below);
        double[] odd = [.. up.Zip(down, (a, b) => 0.5 * (a - b))];
        double[] even = [.. Enumerable.Range(0, counts.Length).Select(i => 0.5 * (up[i] + down[i]) - counts[i])];
        // a probe at right angles moves the rate the same way whichever way it is turned: then the even part is what counts
        return odd.Sum(x => x * x) >= even.Sum(x => x * x) ? odd : even;
    }
}
