using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Backgrounds;

/// <summary>Counts lost while the detector recovers.</summary>
static class DeadTime
{
    /// <summary>Loss above which the report warns: the correction then leans on the model of the detector.</summary>
    const double WorthAWarning = 0.10;

    /// <summary>Share of true counts that the dead time lets through, by bin, from the instantaneous mean rate at full resolution.</summary>
    /// <exception cref="DataFaultException">A rate that no true rate can give: the stated dead time cannot be right.</exception>
    public static double[] Live(ShotGroup group, SignalAxis axis, double deadTime, DeadTimeKind kind)
    {
        var live = new double[axis.Bins];
        double exposure = group.Shots * axis.TickSeconds, most = kind == DeadTimeKind.Paralysable ? Math.Exp(-1) : 1;
        for (int b = 0; b < axis.Bins; b++)
        {
            (double measured, double corrected) = (0, 0);
            for (int i = axis.Edges[b]; i < axis.Edges[b + 1]; i++)
            {
                double dead = group.FullSum[i] / exposure * deadTime;
                if (dead >= most)
                    throw new DataFaultException($"time {axis.OriginSeconds + i * axis.TickSeconds:G4} s of the {group.Condition} shots",
                        $"a rate of {group.FullSum[i] / exposure:G3} counts a second", $"less than {most / deadTime:G3} a second, the most that this dead time allows",
                        "correct dead_time in apparatus.toml, or attenuate the light");
                measured += group.FullSum[i];
                corrected += group.FullSum[i] / Share(dead, kind);
            }
            live[b] = corrected > 0 ? measured / corrected : 1;
        }
        return live;
    }

    /// <summary>A sentence for the report where the loss is large.</summary>
    public static IEnumerable<string> Remarks(string condition, SignalAxis axis, double[] live)
    {
        int worst = Array.IndexOf(live, live.Min());
        if (1 - live[worst] > WorthAWarning)
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{condition}: dead time takes {100 * (1 - live[worst]):F0} % of the counts at {1e3 * axis.CentreSeconds(worst):F2} ms; above {100 * WorthAWarning:F0} % the correction rests on the stated dead time");
    }

    /// <summary>Measured over true rate.</summary>
    /// <param name="dead">Measured rate times dead time.</param>
    /// <param name="kind">Non-paralysable: m = n/(1 + n tau). Paralysable: m = n exp(-n tau), of whose two solutions the lower is meant.</param>
    static double Share(double dead, DeadTimeKind kind)
    {
        if (kind == DeadTimeKind.NonParalysable) return 1 - dead;
        double x = dead;
        // Newton on x exp(-x) = dead from below converges without overshoot, since the left side is concave up to its maximum at 1
        for (int k = 0; k < 60; k++) x -= (x * Math.Exp(-x) - dead) / ((1 - x) * Math.Exp(-x));
        return Math.Exp(-x);
    }
}
