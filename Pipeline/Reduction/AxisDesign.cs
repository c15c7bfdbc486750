namespace Pipeline.Reduction;

/// <summary>Chooses the time bins of a run.</summary>
public static class AxisDesign
{
    /// <summary>Bins that cover the whole record and widen in proportion to the time after the trigger; one edge stands at the
    /// trigger itself where the record holds it.</summary>
    /// <param name="shape">The record.</param>
    /// <param name="relativeWidth">Width as a share of the time after the trigger; positive.</param>
    /// <param name="shortest">No bin is narrower than this, s, apart from the one before the trigger and the last.</param>
    public static SignalAxis For(RecordShape shape, double relativeWidth, double shortest)
    {
        if (!(relativeWidth > 0)) throw new ArgumentOutOfRangeException(nameof(relativeWidth), relativeWidth, "must be positive");
        if (!(shortest > 0)) throw new ArgumentOutOfRangeException(nameof(shortest), shortest, "must be positive");
        int narrowest = Math.Max(1, (int)Math.Round(shortest / shape.TickSeconds));
        int trigger = Math.Clamp((int)Math.Ceiling(-shape.OriginSeconds / shape.TickSeconds - 1e-6), 0, shape.Samples);
        var edges = new List<int> { 0 };
        int before = Math.Max(narrowest, trigger / 20);
        while (edges[^1] < trigger) edges.Add(Math.Min(trigger, edges[^1] + before));
        while (edges[^1] < shape.Samples)
        {
            double after = shape.OriginSeconds + edges[^1] * shape.TickSeconds;
            int width = Math.Max(narrowest, (int)Math.Round(relativeWidth * after / shape.TickSeconds));
            edges.Add(Math.Min(shape.Samples, edges[^1] + width));
        }
        return new SignalAxis(shape.OriginSeconds, shape.TickSeconds, edges);
    }
}
