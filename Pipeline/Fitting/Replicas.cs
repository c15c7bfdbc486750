using Pipeline.Backgrounds;
using Pipeline.Reduction;

namespace Pipeline.Fitting;

/// <summary>The same condition as it could as well have been recorded: blocks of shots of every kind drawn anew, background and all.</summary>
sealed class Replicas
{
    /// <param name="run">The run.</param>
    /// <param name="signal">Of the run itself.</param>
    /// <param name="signalOf">Of a run that was drawn anew.</param>
    /// <param name="settings">Number and seed.</param>
    public Replicas(BinnedRun run, NetSignal signal, Func<BinnedRun, NetSignal> signalOf, FitSettings settings)
    {
        BinnedRun own = run with { Groups = [.. run.Groups.Where(g => g.Condition == signal.Condition)] };
        ulong content = Content(signal);
        Windows = new FitWindow[settings.Replicas];
        Parallel.For(0, Windows.Length, k =>
        {
            var random = new MathNet.Numerics.Random.Xoshiro256StarStar(Seed(settings.Seed, content, k), threadSafe: false);
            NetSignal drawn = signalOf(Resampling.Draw(own, random));
            Windows[k] = new FitWindow(drawn, settings.FromSeconds, settings.ToSeconds);
        });
    }

    Replicas(FitWindow[] windows) => Windows = windows;

    /// <summary>Replicas of several signals that are fitted together.</summary>
    public static Replicas Stack(IReadOnlyList<Replicas> parts, IReadOnlyList<double[]> shared) =>
        new([.. Enumerable.Range(0, parts[0].Windows.Length).Select(k => FitWindow.Stack([.. parts.Select(p => p.Windows[k])], shared))]);

    /// <summary>[replicas].</summary>
    public FitWindow[] Windows { get; }

    /// <summary>[replicas] what each replica gives.</summary>
    public T[] Map<T>(Func<FitWindow, T> of)
    {
        var results = new T[Windows.Length];
        Parallel.For(0, Windows.Length, k => results[k] = of(Windows[k]));
        return results;
    }

    /// <summary>Relative standard error of the mean yield beyond counting: from the scatter of net counts less their Poisson part.</summary>
    public double YieldScatter(FitWindow main)
    {
        static double Net(FitWindow w) => w.Total.Select((t, i) => (t - w.Background[i]) / w.Exposure[i]).Sum();
        double mean = Net(main), poisson = main.Total.Select((t, i) => main.Variance(i, t) / (main.Exposure[i] * main.Exposure[i])).Sum();
        double scatter = Variance(Map(Net));
        return mean > 0 ? Math.Sqrt(Math.Max(0, scatter - poisson)) / mean : 0;
    }

    public static double Variance(double[] values)
    {
        double mean = values.Average();
        return values.Sum(v => (v - mean) * (v - mean)) / Math.Max(1, values.Length - 1);
    }

    /// <summary>A number that depends on the data alone, the same on every machine (FNV-1a).</summary>
    static ulong Content(NetSignal signal)
    {
        ulong hash = 14695981039346656037;
        foreach (double total in signal.Total) hash = (hash ^ BitConverter.DoubleToUInt64Bits(total)) * 1099511628211;
        return hash;
    }

    static int Seed(int seed, ulong content, int replica)
    {
        ulong mixed = (content ^ ((ulong)(uint)seed << 32) ^ (uint)replica) * 0x9E3779B97F4A7C15;
        return (int)(mixed >> 33);
    }
}
