using System.Text.Json;

namespace SampleDay;

/// <summary>A run of the invented day.</summary>
/// <param name="KeepShare">Share of the file that is kept: less than 1 makes a broken one.</param>
public sealed record Entry(Scene Scene, Beam Beam, RunPlan Plan, int Seed, double KeepShare = 1);

/// <summary>The invented day: strontium monofluoride, slowed from 140 m/s.</summary>
public static class Day
{
    const double Capture = 30;
    static readonly string[] Both = ["on", "off"], Off = ["off"];

    public static readonly JsonSerializerOptions Json = new() { WriteIndented = true };

    /// <summary>The beam that the simulation of the day assumes.</summary>
    public static Beam Usual { get; } = new(2500, 140, 24);

    /// <summary>Nature is not quite what the lab notes: each fact is off by less than its stated uncertainty.</summary>
    static Scene Nature { get; } = new() { SourceToProbe = 0.8205, ProbeWidth = 2.02e-3, EmissionDelay = 91e-6, EmissionTail = 47e-6, Efficiency = 1.57e-3 };

    public static IEnumerable<(string Name, Entry Entry)> Runs()
    {
        var alternating = new RunPlan { Conditions = Both, Signal = 120, NoAblation = 30, ProbeBlocked = 12, Dark = 8 };
        yield return ("0912-free.h5", new Entry(Nature, Usual, new RunPlan { Conditions = Off, Signal = 150, NoAblation = 40, ProbeBlocked = 15, Dark = 10 }, 11));
        yield return ("0957-free-wide.csv", new Entry(Nature, Usual,
            new RunPlan { Conditions = Off, Signal = 60, NoAblation = 16, ProbeBlocked = 8, Dark = 6, Step = 20e-6, Samples = 2050 }, 12));
        yield return ("1043-slowed.h5", new Entry(Nature, Usual, alternating, 13));
        yield return ("1125-slowed.h5", new Entry(Nature, Usual,
            alternating with { Decay = 0.1, Mishaps = new Dictionary<int, Mishap> { [57] = Mishap.NoTrigger, [201] = Mishap.Unlocked } }, 14));
        yield return ("1310-slowed.h5", new Entry(Nature with { WorkingStages = 39 }, Usual, alternating, 15));
        yield return ("1402-slowed.h5", new Entry(Nature, Usual with { Emitted = 0.6 * Usual.Emitted }, alternating, 16));
        yield return ("1515-weak.h5", new Entry(Nature, Usual, alternating with { Signal = 4, NoAblation = 3, ProbeBlocked = 2, Dark = 2 }, 17));
        // the probe is moved to 45 degrees; its axis reads 4 MHz on the line, which the scan across the beam tells
        yield return ("1530-across.h5", new Entry(Nature with { AxisZero = 4e6 }, Usual,
            new RunPlan { Conditions = Off, Signal = 100, NoAblation = 25, ProbeBlocked = 12, Dark = 8, Step = 20e-6, Samples = 2050, Scan = Steps(-24e6, 24e6, 25) }, 21));
        yield return ("1545-doppler.h5", new Entry(Nature with { AxisZero = 4e6, Angle = Math.PI / 4 }, Usual,
            new RunPlan { Conditions = Both, Signal = 144, NoAblation = 36, ProbeBlocked = 18, Dark = 12, Step = 20e-6, Samples = 2050, Scan = Steps(0, 245e6, 36) }, 22));
        yield return ("1600-slowed.h5", new Entry(Nature, Usual, alternating with { Signal = 40 }, 18, KeepShare: 0.6));
    }

    static double[] Steps(double from, double to, int points) => [.. Enumerable.Range(0, points).Select(k => from + (to - from) * k / (points - 1))];

    /// <summary>What nature did, by run and condition.</summary>
    public static object Truths() => new
    {
        capture_velocity_m_per_s = Capture,
        nature = Nature,
        runs = Runs().ToDictionary(r => r.Name, r => r.Entry.Plan.Conditions.ToDictionary(c => c, c =>
        {
            Truth t = Truth.Of(r.Entry.Scene, r.Entry.Beam, c == "on", Capture, 99);
            double decay = 1 - 0.5 * r.Entry.Plan.Decay;
            return new
            {
                molecules_per_shot = t.Molecules * decay, mean_velocity_m_per_s = t.MeanSpeed, spread_m_per_s = t.Spread,
                below_capture_per_shot = t.BelowCapture * decay,
            };
        })),
    };
}
