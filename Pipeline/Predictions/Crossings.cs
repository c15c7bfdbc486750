using Pipeline.Apparatus;

namespace Pipeline.Predictions;

/// <summary>The molecules of a list that cross the probe inside its acceptance, after straight flight from where they were. Arrays share one length.</summary>
sealed class Crossings
{
    public Crossings(MoleculeList list, Setup setup, Stretch stretch)
    {
        double distance = setup.Beamline.SourceToProbe.Value, offset = setup.Beamline.TriggerOffset.Value;
        double halfX = setup.Beamline.AcceptanceHalfWidthX ?? double.PositiveInfinity, halfY = setup.Beamline.AcceptanceHalfWidthY ?? double.PositiveInfinity;
        (Time, Speed, Across, Weight) = (new double[list.Count], new double[list.Count], new double[list.Count], new double[list.Count]);
        for (int k = 0; k < list.Count; k++)
        {
            double flight = (distance - list.Z[k]) / list.Vz[k];
            if (Math.Abs(list.X[k] + list.Vx[k] * flight) > halfX || Math.Abs(list.Y[k] + list.Vy[k] * flight) > halfY) continue;
            Time[Count] = stretch.Times * (list.Time[k] + flight) - offset;
            (Speed[Count], Across[Count], Weight[Count]) = (stretch.Speeds * list.Vz[k], stretch.Speeds * list.Vx[k], list.Weight[k]);
            Count++;
        }
        Outside = list.Count - Count;
    }

    public int Count { get; }
    /// <summary>Recorded time at the middle of the probe, s.</summary>
    public double[] Time { get; }
    /// <summary>Along the beam, m/s.</summary>
    public double[] Speed { get; }
    /// <summary>Horizontal, across the beam, m/s.</summary>
    public double[] Across { get; }
    /// <summary>Molecules a shot.</summary>
    public double[] Weight { get; }
    /// <summary>Rows that miss the acceptance.</summary>
    public int Outside { get; }
}
