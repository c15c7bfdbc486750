namespace Pipeline.Statistics;

/// <summary>p-values of several questions asked at once.</summary>
public static class MultipleComparisons
{
    /// <summary>Adjusted p-values, in the order given: rejecting those below a level keeps the chance of any false rejection below it.</summary>
    /// <param name="p">Each in [0, 1]; may be empty.</param>
    /// <exception cref="ArgumentOutOfRangeException">A value outside [0, 1] or NaN, which would turn all the others into NaN.</exception>
    /// <remarks>Source: Holm, Scand. J. Stat. 6, 65 (1979).</remarks>
    public static double[] Holm(ReadOnlySpan<double> p)
    {
        double[] values = p.ToArray();
        foreach (double value in values)
            if (value is not (>= 0 and <= 1)) throw new ArgumentOutOfRangeException(nameof(p), value, "each p-value must lie in [0, 1]");
        int[] order = [.. Enumerable.Range(0, values.Length).OrderBy(i => values[i])];
        var adjusted = new double[values.Length];
        double running = 0;
        for (int k = 0; k < order.Length; k++)
        {
            running = Math.Max(running, Math.Min(1, (order.Length - k) * values[order[k]]));
            adjusted[order[k]] = running;
        }
        return adjusted;
    }
}
