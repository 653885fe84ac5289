using TmLab.Failures;

namespace TmLab.Storage.StageFiles;

/// <summary>Looks at stage files of any kind.</summary>
public static class StageFile
{
    /// <summary>Says what a stage file holds.</summary>
    /// <exception cref="BadInputException">The file is missing, damaged or no stage file.</exception>
    public static StageFileDescription Describe(string path)
    {
        using var reader = StageFileReader.Open(path, null);
        return reader.Describe();
    }
}
