using System.Diagnostics;
using System.Globalization;

namespace Pipeline.Tests.Benchmarks;

/// <summary>Repeated measurements of one piece of work.</summary>
/// <param name="What">The work, as the table names it.</param>
/// <param name="Seconds">[repeats] wall time of each.</param>
sealed record Stopwatches(string What, double[] Seconds)
{
    public double Median { get; } = MathNet.Numerics.Statistics.Statistics.Median(Seconds);
    public double Least { get; } = Seconds.Min();
    public double Most { get; } = Seconds.Max();

    /// <summary>Times a piece of work after it has run unmeasured: the compiler replaces code that has run often.</summary>
    /// <param name="what">The work, as the table names it.</param>
    /// <param name="work">The work.</param>
    /// <param name="repeats">Measured runs, at least five.</param>
    /// <param name="warmups">Runs before them.</param>
    public static Stopwatches Measure(string what, Action work, int repeats = 9, int warmups = 5)
    {
        ArgumentOutOfRangeException.ThrowIfLessThan(repeats, 5);
        for (int k = 0; k < warmups; k++)
        {
            work();
            Thread.Sleep(100); // the compiler works in the background
        }
        var seconds = new double[repeats];
        for (int k = 0; k < repeats; k++)
        {
            long start = Stopwatch.GetTimestamp();
            work();
            seconds[k] = Stopwatch.GetElapsedTime(start).TotalSeconds;
        }
        return new Stopwatches(what, seconds);
    }

    /// <summary>A table with one row for each piece of work, and how much longer it takes than the first.</summary>
    public static IEnumerable<string> Table(params IReadOnlyList<Stopwatches> all)
    {
        yield return $"{Environment.ProcessorCount} cores, {System.Runtime.InteropServices.RuntimeInformation.FrameworkDescription}";
        yield return $"{"",-60} {"median s",10} {"least s",10} {"most s",10} {"ratio",8} {"runs",5}";
        foreach (Stopwatches s in all)
            yield return string.Create(CultureInfo.InvariantCulture, $"{s.What,-60} {s.Median,10:F4} {s.Least,10:F4} {s.Most,10:F4} {s.Median / all[0].Median,8:F2} {s.Seconds.Length,5}");
    }
}
