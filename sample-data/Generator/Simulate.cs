namespace SampleDay;

/// <summary>Kinds of shot, as the files name them.</summary>
public enum Kind
{
    Signal,
    NoAblation,
    ProbeBlocked,
    Dark,
}

/// <summary>What a shot records.</summary>
/// <param name="Counts">[samples].</param>
public sealed record Shot(int Number, Kind Kind, string Condition, double ProbeMonitor, double AblationMonitor, double Detuning, short[] Counts)
{
    /// <summary>Point of a scan.</summary>
    public int Point { get; init; }
}

/// <summary>A shot that goes wrong.</summary>
public enum Mishap
{
    None,
    NoTrigger,
    Unlocked,
}

/// <summary>What is recorded in which order.</summary>
public sealed record RunPlan
{
    /// <summary>Conditions, taken in turn.</summary>
    public required string[] Conditions { get; init; }
    /// <summary>Shots of each kind for each condition.</summary>
    public required int Signal { get; init; }
    public required int NoAblation { get; init; }
    public required int ProbeBlocked { get; init; }
    public required int Dark { get; init; }
    public double Start { get; init; } = -1e-3;
    public double Step { get; init; } = 10e-6;
    public int Samples { get; init; } = 4100;
    /// <summary>Yield falls by this share over the run.</summary>
    public double Decay { get; init; }
    /// <summary>Laser frequencies of a scan, one after the other over the run, Hz from the line; empty: the laser stays on the line.</summary>
    public double[] Scan { get; init; } = [];
    /// <summary>The scan goes up, and then down again.</summary>
    public bool UpDown { get; init; }
    /// <summary>Points on the way down have numbers of their own.</summary>
    public bool PassesApart { get; init; }
    /// <summary>The laser moves up against its reading by this much over the run, Hz.</summary>
    public double AxisDrift { get; init; }
    /// <summary>Shot numbers that go wrong.</summary>
    public IReadOnlyDictionary<int, Mishap> Mishaps { get; init; } = new Dictionary<int, Mishap>();
}

/// <summary>Shots, molecule by molecule and photon by photon.</summary>
public static class Simulate
{
    const double YieldScatter = 0.3, AblationNoise = 0.08, ProbeNoise = 0.005;

    public static IReadOnlyList<Shot> Run(Scene scene, Beam beam, RunPlan plan, int seed)
    {
        var draw = new Draw(seed);
        (Kind Kind, string Condition)[] order = Order(plan);
        return [.. order.Select((s, k) => One(scene, beam, plan, draw, k, s.Kind, s.Condition, (double)k / order.Length))];
    }

    /// <summary>Kinds are spread evenly over the run; conditions alternate within each kind.</summary>
    static (Kind, string)[] Order(RunPlan plan)
    {
        var all = new List<(double Place, int Rank, Kind Kind, string Condition)>();
        foreach ((Kind kind, int shots) in ((Kind, int)[])[(Kind.Signal, plan.Signal), (Kind.NoAblation, plan.NoAblation), (Kind.ProbeBlocked, plan.ProbeBlocked), (Kind.Dark, plan.Dark)])
        {
            int total = shots * plan.Conditions.Length;
            for (int k = 0; k < total; k++) all.Add(((k + 0.5) / total, (int)kind, kind, plan.Conditions[k % plan.Conditions.Length]));
        }
        return [.. all.OrderBy(a => a.Place).ThenBy(a => a.Rank).Select(a => (a.Kind, a.Condition))];
    }

    static Shot One(Scene scene, Beam beam, RunPlan plan, Draw draw, int number, Kind kind, string condition, double progress)
    {
        bool lit = kind is Kind.Signal or Kind.NoAblation, fired = kind is Kind.Signal or Kind.ProbeBlocked;
        Mishap mishap = plan.Mishaps.GetValueOrDefault(number);
        double power = lit ? 1 + 0.03 * Math.Sin(2 * Math.PI * progress) : 0;
        double yield = fired ? Math.Exp(YieldScatter * draw.Normal() - 0.5 * YieldScatter * YieldScatter) * (1 - plan.Decay * progress) : 0;
        int passed = (int)(progress * plan.Scan.Length * (plan.UpDown ? 2 : 1)), point = passed < plan.Scan.Length ? passed : 2 * plan.Scan.Length - 1 - passed;
        double detuning = scene.LaserJitter * draw.Normal() + (mishap == Mishap.Unlocked ? 450e6 : 0) + (plan.Scan.Length > 0 ? plan.Scan[point] : 0);
        var times = new List<double>();
        if (lit && fired) Molecules(scene, beam, draw, condition == "on", yield, detuning + plan.AxisDrift * (progress - 0.5), power, times);
        double span = plan.Samples * plan.Step;
        Steady(draw, (scene.ScatterRate * power + scene.DarkRate) * span, plan.Start, span, times);
        if (fired) for (int f = 0; f < scene.FlashCounts.Length; f++) Flash(draw, scene.FlashCounts[f] * yield, scene.FlashTimes[f], times);
        short[] counts = mishap == Mishap.NoTrigger ? new short[plan.Samples] : Record(scene, plan, times);
        return new Shot(number, kind, condition, scene.ProbeMonitorZero + power + (lit ? ProbeNoise : 0.002) * draw.Normal(),
            scene.AblationMonitorZero + yield * (1 + AblationNoise * draw.Normal()), detuning + scene.AxisZero + 0.2e6 * draw.Normal(), counts) { Point = plan.PassesApart ? passed : point };
    }

    static void Molecules(Scene scene, Beam beam, Draw draw, bool on, double yield, double detuning, double power, List<double> times)
    {
        foreach (Beam part in beam.Parts)
            for (int m = draw.Poisson(part.Emitted * yield); m > 0; m--)
                if (Flight.ToProbe(scene, Flight.Emit(scene, part, draw), on) is { } at) Fluorescence.Detect(scene, at, detuning, power, draw, times);
    }

    static void Steady(Draw draw, double mean, double start, double span, List<double> times)
    {
        for (int n = draw.Poisson(mean); n > 0; n--) times.Add(start + span * draw.Uniform());
    }

    static void Flash(Draw draw, double mean, double decay, List<double> times)
    {
        for (int n = draw.Poisson(mean); n > 0; n--) times.Add(decay * draw.Exponential());
    }

    /// <summary>A count is lost while the detector recovers from the one before that was counted.</summary>
    static short[] Record(Scene scene, RunPlan plan, List<double> times)
    {
        times.Sort();
        var counts = new short[plan.Samples];
        double ready = double.NegativeInfinity;
        foreach (double t in times)
        {
            if (t < ready) continue;
            ready = t + scene.DeadTime;
            double place = (t - plan.Start) / plan.Step;
            if (place >= 0 && place < plan.Samples) counts[(int)place]++;
        }
        return counts;
    }
}
