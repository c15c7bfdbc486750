namespace Pipeline.Reduction;

/// <summary>Which shot of the run a shot was, by the shots' own numbers: files that keep kinds apart do not hold them in order.</summary>
sealed class ShotPlaces
{
    readonly Dictionary<long, int> _places = [];

    /// <param name="shots">Housekeeping of every shot of the file.</param>
    public ShotPlaces(IReadOnlyList<ShotInfo> shots)
    {
        foreach (ShotInfo shot in shots.OrderBy(s => s.Number)) _places.TryAdd(shot.Number, _places.Count);
    }

    /// <summary>0 for the first shot of the run.</summary>
    public int Of(ShotInfo shot) => _places[shot.Number];
}
