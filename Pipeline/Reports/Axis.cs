namespace Pipeline.Reports;

/// <summary>A range of values on a stretch of the picture.</summary>
/// <param name="Low">Value at the start.</param>
/// <param name="High">Value at the end.</param>
/// <param name="From">Pixel at the start.</param>
/// <param name="To">Pixel at the end; less than <paramref name="From"/> for an axis that runs up.</param>
readonly record struct Axis(double Low, double High, double From, double To)
{
    public double At(double value) => From + (Math.Clamp(value, Low, High) - Low) / (High - Low) * (To - From);

    /// <summary>About so many round values.</summary>
    public IEnumerable<double> Ticks(int about)
    {
        double raw = (High - Low) / about, power = Math.Pow(10, Math.Floor(Math.Log10(raw))), rest = raw / power;
        double step = power * (rest < 1.5 ? 1 : rest < 3.5 ? 2 : rest < 7.5 ? 5 : 10);
        for (double k = Math.Ceiling(Low / step - 1e-9); k * step <= High + 1e-9 * step; k++) yield return k * step;
    }

    /// <summary>A little more than what the values need.</summary>
    public static (double Low, double High) Around(IEnumerable<double> values, double margin = 0.06)
    {
        double[] finite = [.. values.Where(double.IsFinite)];
        (double low, double high) = finite.Length == 0 ? (0, 1) : (finite.Min(), finite.Max());
        double room = margin * (high > low ? high - low : Math.Max(Math.Abs(high), 1));
        return (low - room, high + room);
    }
}
