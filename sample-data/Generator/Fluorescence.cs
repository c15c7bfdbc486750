namespace SampleDay;

/// <summary>Photons of one molecule.</summary>
public static class Fluorescence
{
    /// <summary>Detection times of a molecule that crosses the middle of the probe at its time. Each scattered photon comes after an
    /// exponential wait; after each the molecule goes dark with probability 1/limit.</summary>
    /// <param name="scene">Nature.</param>
    /// <param name="molecule">At the probe.</param>
    /// <param name="detuning">Of the laser in this shot, Hz.</param>
    /// <param name="power">Probe light relative to the nominal.</param>
    /// <param name="draw">Random stream.</param>
    /// <param name="times">Receives the times.</param>
    public static void Detect(Scene scene, Molecule molecule, double detuning, double power, Draw draw, List<double> times)
    {
        double along = molecule.Speed * Math.Cos(scene.Angle) + molecule.Vx * Math.Sin(scene.Angle);
        double seen = 2 * (detuning - along / scene.Wavelength - Level(scene, draw)) / scene.Linewidth, s = scene.Saturation * power;
        double rate = 2 * Math.PI * scene.Linewidth * scene.ExcitedLevels / (scene.GroundLevels + scene.ExcitedLevels) * s / (1 + s + seen * seen);
        double inside = scene.ProbeWidth / molecule.Speed, start = molecule.Time - 0.5 * inside;
        // going dark and being detected are independent thinnings of the scattered photons
        double dark = draw.Exponential() * scene.PhotonLimit / rate, bright = Math.Min(inside, dark);
        int detected = draw.Poisson(rate * scene.Efficiency * bright);
        for (int k = 0; k < detected; k++) times.Add(start + bright * draw.Uniform());
    }

    /// <summary>Offset of the line that belongs to the molecule's level; no draw where there is only one.</summary>
    static double Level(Scene scene, Draw draw)
    {
        if (scene.Lines.Length == 1) return scene.Lines[0].Offset;
        double place = draw.Uniform() * scene.Lines.Sum(l => l.Share);
        foreach ((double offset, double share) in scene.Lines)
        {
            place -= share;
            if (place <= 0) return offset;
        }
        return scene.Lines[^1].Offset;
    }
}
