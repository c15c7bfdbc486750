using Pipeline.Backgrounds;

namespace Pipeline.Fitting;

/// <summary>The part of a signal that is fitted, as the solvers want it.</summary>
sealed class FitWindow
{
    /// <param name="signal">The signal.</param>
    /// <param name="fromSeconds">Bins that begin earlier are left out.</param>
    /// <param name="toSeconds">Bins that end later are left out; null: none.</param>
    public FitWindow(NetSignal signal, double fromSeconds, double? toSeconds)
    {
        int[] bins = [.. Enumerable.Range(0, signal.Axis.Bins).Where(i =>
            signal.Axis.StartSeconds(i) >= fromSeconds - 1e-12 && signal.Axis.EndSeconds(i) <= (toSeconds ?? double.PositiveInfinity) + 1e-12)];
        if (bins.Length < 5)
            throw new DataFaultException($"fit window of condition \"{signal.Condition}\"", $"{bins.Length} bins", "at least 5",
                "correct fit_from and fit_to in night.toml, or record longer");
        (First, Count) = (bins[0], bins.Length);
        Total = Part(signal.Total);
        Exposure = [.. Part(signal.Live).Select(l => l * signal.Shots)];
        Background = Part(signal.Background);
        ExtraVariance = Part(signal.BackgroundVariance);
        TotalVariance = signal.TotalVariance is { } variance ? Part(variance) : null;
        Causes = [.. signal.Causes.Select(c => Part(c.Vector)).Where(v => v.Any(x => x != 0))];
    }

    FitWindow(int first, double[] total, double[] exposure, double[] background, double[] extraVariance, double[]? totalVariance, double[][] causes)
    {
        (First, Count, Total, Exposure, Background, ExtraVariance, TotalVariance, Causes) =
            (first, total.Length, total, exposure, background, extraVariance, totalVariance, causes);
    }

    /// <summary>Several windows as one: bins one after the other, each cause in its own part.</summary>
    /// <param name="parts">Windows.</param>
    /// <param name="shared">Further causes over all bins.</param>
    public static FitWindow Stack(IReadOnlyList<FitWindow> parts, IEnumerable<double[]> shared)
    {
        int bins = parts.Sum(p => p.Count);
        double[] All(Func<FitWindow, double[]> of) => [.. parts.SelectMany(of)];
        var causes = new List<double[]>();
        int offset = 0;
        foreach (FitWindow part in parts)
        {
            int from = offset;
            causes.AddRange(part.Causes.Select(c => Placed(c, from, bins)));
            offset += part.Count;
        }
        bool measured = parts.Any(p => p.TotalVariance is not null);
        return new FitWindow(0, All(p => p.Total), All(p => p.Exposure), All(p => p.Background), All(p => p.ExtraVariance),
            measured ? All(p => p.TotalVariance ?? [.. p.Total.Select(t => Math.Max(t, 1))]) : null, [.. causes, .. shared]);
    }

    /// <summary>A vector over some bins as one over all of them.</summary>
    public static double[] Placed(double[] part, int from, int bins)
    {
        var whole = new double[bins];
        part.CopyTo(whole, from);
        return whole;
    }

    /// <summary>The same window with so much more in it.</summary>
    public FitWindow Plus(double[] more) =>
        new(First, [.. Total.Zip(more, (t, m) => t + m)], Exposure, Background, ExtraVariance, TotalVariance, Causes);

    /// <summary>First bin of the axis.</summary>
    public int First { get; }
    public int Count { get; }
    public double[] Total { get; }
    /// <summary>Shots times live share.</summary>
    public double[] Exposure { get; }
    public double[] Background { get; }
    public double[] ExtraVariance { get; }
    public double[]? TotalVariance { get; }
    /// <summary>[causes][bins].</summary>
    public double[][] Causes { get; }

    /// <summary>Variance of a bin's total where this mean is expected.</summary>
    public double Variance(int bin, double mean) =>
        TotalVariance is { } v ? Math.Max(v[bin], 1e-12) + ExtraVariance[bin] : Math.Max(mean, 1e-2) + ExtraVariance[bin];

    double[] Part(double[] whole) => whole[First..(First + Count)];
}
