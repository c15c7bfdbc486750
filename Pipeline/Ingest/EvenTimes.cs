using System.Globalization;

namespace Pipeline.Ingest;

/// <summary>Sampling times that a file lists one by one, brought back to start and step.</summary>
static class EvenTimes
{
    /// <summary>The step as printed: nine digits, if all times agree with it to 1 % of a step.</summary>
    /// <param name="where">For the fault.</param>
    /// <param name="times">[n] in the unit of the file, rising.</param>
    /// <exception cref="DataFaultException">Fewer than two times, or steps that are not even.</exception>
    public static double Step(string where, IReadOnlyList<double> times)
    {
        if (times.Count < 2) throw new DataFaultException(where, $"{times.Count} rows", "two or more sampling times", "export the file again");
        double step = (times[^1] - times[0]) / (times.Count - 1);
        double printed = double.Parse(step.ToString("G9", CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
        for (int i = 0; i < times.Count; i++)
            if (!(Math.Abs(times[i] - times[0] - i * printed) <= 0.01 * printed))
                throw new DataFaultException($"{where}, sample {i}", $"time {times[i].ToString(CultureInfo.InvariantCulture)}",
                    $"{(times[0] + i * printed).ToString("G9", CultureInfo.InvariantCulture)}: even steps", "export the file with more digits, or without gaps");
        return printed;
    }
}
