using Pipeline.Reduction;

namespace Pipeline.Backgrounds;

/// <summary>Counts lost while the detector recovers.</summary>
static class DeadTime
{
    /// <summary>Share of true counts that a non-paralysable dead time lets through, by bin, from the instantaneous mean rate at full
    /// resolution.</summary>
    /// <remarks>Measured rate m = n/(1 + n tau), so n = m/(1 - m tau).</remarks>
    /// <exception cref="DataFaultException">The rate reaches the inverse of the dead time: the stated dead time cannot be right.</exception>
    public static double[] Live(ShotGroup group, SignalAxis axis, double deadTime)
    {
        var live = new double[axis.Bins];
        double exposure = group.Shots * axis.TickSeconds;
        for (int b = 0; b < axis.Bins; b++)
        {
            (double measured, double corrected) = (0, 0);
            for (int i = axis.Edges[b]; i < axis.Edges[b + 1]; i++)
            {
                double dead = group.FullSum[i] / exposure * deadTime;
                if (dead >= 1)
                    throw new DataFaultException($"time {axis.OriginSeconds + i * axis.TickSeconds:G4} s of the {group.Condition} shots",
                        $"a rate of {group.FullSum[i] / exposure:G3} counts a second", $"less than {1 / deadTime:G3} a second, the inverse of the dead time",
                        "correct dead_time in apparatus.toml, or attenuate the light");
                measured += group.FullSum[i];
                corrected += group.FullSum[i] / (1 - dead);
            }
            live[b] = corrected > 0 ? measured / corrected : 1;
        }
        return live;
    }
}
