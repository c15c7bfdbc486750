namespace Pipeline.Reduction;

/// <summary>Time bins of a record, as whole sampling ticks; half-open [edge, next edge).</summary>
/// <remarks>Edges are integers so that no rounding moves a sample between bins: seconds are derived, never stored.</remarks>
public sealed record SignalAxis
{
    /// <param name="originSeconds">Time after the trigger at which the first sample begins, s.</param>
    /// <param name="tickSeconds">Sampling interval, s; positive.</param>
    /// <param name="edges">[bins + 1] ticks after the origin, rising.</param>
    /// <exception cref="ArgumentOutOfRangeException">A tick that is not positive, fewer than two edges, or edges that do not rise.</exception>
    public SignalAxis(double originSeconds, double tickSeconds, IReadOnlyList<int> edges)
    {
        if (!double.IsFinite(originSeconds)) throw new ArgumentOutOfRangeException(nameof(originSeconds), originSeconds, "must be finite");
        if (!(tickSeconds > 0) || !double.IsFinite(tickSeconds)) throw new ArgumentOutOfRangeException(nameof(tickSeconds), tickSeconds, "must be positive");
        if (edges.Count < 2) throw new ArgumentOutOfRangeException(nameof(edges), edges.Count, "needs two edges or more");
        for (int i = 1; i < edges.Count; i++)
            if (edges[i] <= edges[i - 1]) throw new ArgumentOutOfRangeException(nameof(edges), edges[i], $"must rise above {edges[i - 1]}");
        OriginSeconds = originSeconds;
        TickSeconds = tickSeconds;
        Edges = edges;
    }

    public double OriginSeconds { get; }
    public double TickSeconds { get; }
    public IReadOnlyList<int> Edges { get; }

    /// <summary>Number of bins.</summary>
    public int Bins => Edges.Count - 1;

    /// <summary>Lower edge of <paramref name="bin"/> (or, for bin = Bins, the upper end), s after the trigger.</summary>
    public double EdgeSeconds(int bin) => OriginSeconds + Edges[bin] * TickSeconds;

    /// <summary>Width of a bin, s.</summary>
    public double WidthSeconds(int bin) => (Edges[bin + 1] - Edges[bin]) * TickSeconds;

    /// <summary>Middle of a bin, s after the trigger.</summary>
    public double CentreSeconds(int bin) => OriginSeconds + 0.5 * (Edges[bin] + Edges[bin + 1]) * TickSeconds;

    /// <summary>All edges in seconds after the trigger, [bins + 1].</summary>
    public double[] EdgesInSeconds() => [.. Edges.Select(e => OriginSeconds + e * TickSeconds)];
}
