namespace Pipeline.Reduction;

/// <summary>Time bins of a record, as whole sampling ticks, half-open [edge, next edge); in a scan these for each point, one point after the
/// other.</summary>
/// <remarks>Edges are integers so that no rounding moves a sample between bins: seconds are derived, never stored.</remarks>
public sealed record SignalAxis
{
    /// <param name="originSeconds">Time after the trigger at which the first sample begins, s.</param>
    /// <param name="tickSeconds">Sampling interval, s; positive.</param>
    /// <param name="edges">[bins + 1] ticks after the origin, rising.</param>
    /// <param name="points">[points] laser readings of a scan, Hz; null or empty: no scan.</param>
    /// <param name="light">[points] probe light at each point relative to its mean over the scan; null or empty: the same at all.</param>
    /// <param name="order">[points] mean place of each point's shots in the run, -0.5 first to 0.5 last; null or empty: all in the middle.</param>
    /// <exception cref="ArgumentOutOfRangeException">A tick that is not positive, fewer than two edges, or edges that do not rise.</exception>
    public SignalAxis(double originSeconds, double tickSeconds, IReadOnlyList<int> edges, IReadOnlyList<double>? points = null, IReadOnlyList<double>? light = null,
        IReadOnlyList<double>? order = null)
    {
        if (!double.IsFinite(originSeconds)) throw new ArgumentOutOfRangeException(nameof(originSeconds), originSeconds, "must be finite");
        if (!(tickSeconds > 0) || !double.IsFinite(tickSeconds)) throw new ArgumentOutOfRangeException(nameof(tickSeconds), tickSeconds, "must be positive");
        if (edges.Count < 2) throw new ArgumentOutOfRangeException(nameof(edges), edges.Count, "needs two edges or more");
        for (int i = 1; i < edges.Count; i++)
            if (edges[i] <= edges[i - 1]) throw new ArgumentOutOfRangeException(nameof(edges), edges[i], $"must rise above {edges[i - 1]}");
        OriginSeconds = originSeconds;
        TickSeconds = tickSeconds;
        Edges = edges;
        Points = points ?? [];
        Light = light is { Count: > 0 } ? light : [.. Points.Select(_ => 1.0)];
        if (Light.Count != Points.Count) throw new ArgumentOutOfRangeException(nameof(light), Light.Count, $"must be one for each of {Points.Count} points");
        Order = order is { Count: > 0 } ? order : [.. Points.Select(_ => 0.0)];
        if (Order.Count != Points.Count) throw new ArgumentOutOfRangeException(nameof(order), Order.Count, $"must be one for each of {Points.Count} points");
    }

    public double OriginSeconds { get; }
    public double TickSeconds { get; }
    public IReadOnlyList<int> Edges { get; }

    /// <summary>[points] laser readings of a scan, Hz; empty where there is none.</summary>
    public IReadOnlyList<double> Points { get; }

    /// <summary>[points] probe light at each point relative to its mean over the scan.</summary>
    public IReadOnlyList<double> Light { get; }

    /// <summary>[points] mean place of each point's shots in the run, -0.5 first to 0.5 last.</summary>
    public IReadOnlyList<double> Order { get; }

    /// <summary>Number of time bins.</summary>
    public int TimeBins => Edges.Count - 1;

    /// <summary>Number of bins: of time, times the points of a scan.</summary>
    public int Bins => TimeBins * Math.Max(1, Points.Count);

    /// <summary>A time edge, 0 to <see cref="TimeBins"/>, s after the trigger.</summary>
    public double EdgeSeconds(int edge) => OriginSeconds + Edges[edge] * TickSeconds;

    /// <summary>Lower edge of a bin, s after the trigger.</summary>
    public double StartSeconds(int bin) => EdgeSeconds(bin % TimeBins);

    /// <summary>Upper edge of a bin, s after the trigger.</summary>
    public double EndSeconds(int bin) => EdgeSeconds(bin % TimeBins + 1);

    /// <summary>Width of a bin, s.</summary>
    public double WidthSeconds(int bin) => (Edges[bin % TimeBins + 1] - Edges[bin % TimeBins]) * TickSeconds;

    /// <summary>Middle of a bin, s after the trigger.</summary>
    public double CentreSeconds(int bin) => OriginSeconds + 0.5 * (Edges[bin % TimeBins] + Edges[bin % TimeBins + 1]) * TickSeconds;

    /// <summary>All edges in seconds after the trigger, [bins + 1].</summary>
    public double[] EdgesInSeconds() => [.. Edges.Select(e => OriginSeconds + e * TickSeconds)];
}
