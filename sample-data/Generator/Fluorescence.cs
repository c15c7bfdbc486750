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
        double seen = 2 * (detuning - molecule.Vx / scene.Wavelength) / scene.Linewidth, s = scene.Saturation * power;
        double rate = 2 * Math.PI * scene.Linewidth * scene.ExcitedLevels / (scene.GroundLevels + scene.ExcitedLevels) * s / (1 + s + seen * seen);
        double inside = scene.ProbeWidth / molecule.Speed, start = molecule.Time - 0.5 * inside;
        // going dark and being detected are independent thinnings of the scattered photons
        double dark = draw.Exponential() * scene.PhotonLimit / rate, bright = Math.Min(inside, dark);
        int detected = draw.Poisson(rate * scene.Efficiency * bright);
        for (int k = 0; k < detected; k++) times.Add(start + bright * draw.Uniform());
    }
}
