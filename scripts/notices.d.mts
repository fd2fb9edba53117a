interface PackageNotice {
  name: string
  version: string
  licence: string
  copyright: string[]
  text: string | null
}

export declare const listPackages: () => PackageNotice[]
export declare const renderRow: (notice: PackageNotice) => string
export declare const renderNotices: () => string
